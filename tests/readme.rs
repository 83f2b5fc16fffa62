//! The console examples of the README, run and compared.

#[test]
fn console_examples_of_the_readme() {
    trycmd::TestCases::new().case("README.md");
}
