//! Which correlation gives what: the user's choice.

/// A list of choices with the words of a scenario.
macro_rules! choice {
    ($(#[$about:meta])* $name:ident { $($(#[$variant_about:meta])* $variant:ident = $word:literal, $who:literal;)+ }) => {
        $(#[$about])*
        #[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
        pub enum $name {
            $($(#[$variant_about])* $variant,)+
        }

        impl $name {
            /// All of them.
            pub const ALL: &'static [Self] = &[$(Self::$variant),+];

            /// The word of a scenario.
            pub fn word(self) -> &'static str {
                match self { $(Self::$variant => $word),+ }
            }

            /// The authors, as reports name them.
            pub fn authors(self) -> &'static str {
                match self { $(Self::$variant => $who),+ }
            }

            /// The choice of a scenario's word.
            pub fn of_word(word: &str) -> Option<Self> {
                Self::ALL.iter().copied().find(|choice| choice.word() == word)
            }
        }
    };
}

choice! {
    /// Bubble point, dissolved gas and volume factor of saturated oil.
    OilCorrelation {
        /// Standing (1947).
        #[default]
        Standing = "standing", "Standing";
        /// Vasquez and Beggs (1980).
        VasquezBeggs = "vasquez-beggs", "Vasquez-Beggs";
        /// Glaso (1980).
        Glaso = "glaso", "Glaso";
        /// Al-Marhoun (1988).
        AlMarhoun = "al-marhoun", "Al-Marhoun";
        /// Petrosky and Farshad (1993).
        PetroskyFarshad = "petrosky-farshad", "Petrosky-Farshad";
    }
}

choice! {
    /// Viscosity of oil without gas.
    DeadOilCorrelation {
        /// Beggs and Robinson (1975).
        #[default]
        BeggsRobinson = "beggs-robinson", "Beggs-Robinson";
        /// Beal (1946) in Standing's form (1977).
        Beal = "beal", "Beal-Standing";
        /// Glaso (1980).
        Glaso = "glaso", "Glaso";
    }
}

choice! {
    /// Viscosity of oil with its gas.
    LiveOilCorrelation {
        /// Beggs and Robinson (1975).
        #[default]
        BeggsRobinson = "beggs-robinson", "Beggs-Robinson";
        /// Chew and Connally (1959).
        ChewConnally = "chew-connally", "Chew-Connally";
    }
}

choice! {
    /// Viscosity of oil above its bubble point.
    UndersaturatedCorrelation {
        /// Vasquez and Beggs (1980).
        #[default]
        VasquezBeggs = "vasquez-beggs", "Vasquez-Beggs";
        /// Beal (1946).
        Beal = "beal", "Beal";
    }
}

choice! {
    /// Compressibility factor of the gas.
    ZCorrelation {
        /// Dranchuk and Abou-Kassem (1975).
        #[default]
        DranchukAbouKassem = "dranchuk-abou-kassem", "Dranchuk-Abou-Kassem";
        /// Hall and Yarborough (1973).
        HallYarborough = "hall-yarborough", "Hall-Yarborough";
    }
}

/// The correlations of one fluid.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Correlations {
    /// Bubble point, dissolved gas, volume factor of saturated oil.
    pub oil: OilCorrelation,
    /// Viscosity of oil without gas.
    pub dead_oil: DeadOilCorrelation,
    /// Viscosity of saturated oil.
    pub live_oil: LiveOilCorrelation,
    /// Viscosity above the bubble point.
    pub undersaturated: UndersaturatedCorrelation,
    /// Compressibility factor of the gas.
    pub z: ZCorrelation,
}
