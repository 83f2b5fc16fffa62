//! CSV, JSON and pictures of a finished forecast.
