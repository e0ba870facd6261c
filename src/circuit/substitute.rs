//! Putting numbers in the place of symbols.

use super::{Circuit, Law, SymbolId, Value};

impl Value {
    /// The value with symbols replaced where `replace` gives something.
    #[must_use]
    pub fn replaced(&self, replace: &dyn Fn(SymbolId) -> Option<Self>) -> Self {
        let all = |values: &[Self]| values.iter().map(|value| value.replaced(replace)).collect();
        match self {
            Self::Number(_) | Self::S => self.clone(),
            Self::Symbol(symbol) => replace(*symbol).unwrap_or_else(|| self.clone()),
            Self::Sum(terms) => Self::Sum(all(terms)),
            Self::Product(factors) => Self::Product(all(factors)),
            Self::Power(base, exponent) => Self::Power(Box::new(base.replaced(replace)), *exponent),
            Self::Negative(inner) => Self::Negative(Box::new(inner.replaced(replace))),
            Self::Parallel(parts) => Self::Parallel(all(parts)),
        }
    }

    /// Whether `s` stands in the value.
    pub fn holds_s(&self) -> bool {
        match self {
            Self::S => true,
            Self::Number(_) | Self::Symbol(_) => false,
            Self::Power(inner, _) | Self::Negative(inner) => inner.holds_s(),
            Self::Sum(parts) | Self::Product(parts) | Self::Parallel(parts) => {
                parts.iter().any(Self::holds_s)
            }
        }
    }

    /// Calls `visit` for every symbol in the value.
    pub fn for_each_symbol(&self, visit: &mut dyn FnMut(SymbolId)) {
        match self {
            Self::Number(_) | Self::S => {}
            Self::Symbol(symbol) => visit(*symbol),
            Self::Power(inner, _) | Self::Negative(inner) => inner.for_each_symbol(visit),
            Self::Sum(parts) | Self::Product(parts) | Self::Parallel(parts) => {
                parts.iter().for_each(|part| part.for_each_symbol(visit));
            }
        }
    }
}

impl Law {
    /// The values in the law.
    pub fn values(&self) -> Vec<&Value> {
        match self {
            Self::Impedance(value)
            | Self::Admittance(value)
            | Self::Transformer { ratio: value, .. }
            | Self::Gyrator { conductance: value, .. }
            | Self::Mutual { inductance: value, .. } => vec![value],
            Self::ControlledVoltage(controls) | Self::ControlledCurrent(controls) => {
                controls.iter().map(|control| &control.gain).collect()
            }
            Self::VoltageSource | Self::CurrentSource | Self::Nullor(..) => Vec::new(),
        }
    }

    /// The values in the law, to be changed.
    pub fn values_mut(&mut self) -> Vec<&mut Value> {
        match self {
            Self::Impedance(value)
            | Self::Admittance(value)
            | Self::Transformer { ratio: value, .. }
            | Self::Gyrator { conductance: value, .. }
            | Self::Mutual { inductance: value, .. } => vec![value],
            Self::ControlledVoltage(controls) | Self::ControlledCurrent(controls) => {
                controls.iter_mut().map(|control| &mut control.gain).collect()
            }
            Self::VoltageSource | Self::CurrentSource | Self::Nullor(..) => Vec::new(),
        }
    }
}

impl Circuit {
    /// The circuit with the nominal values of the symbols that `chosen` picks put in, exactly.
    ///
    /// # Errors
    /// The first symbol that is used, picked and has no nominal value.
    pub fn with_numbers(&self, chosen: impl Fn(SymbolId) -> bool) -> Result<Self, SymbolId> {
        let mut missing = None;
        for value in self.elements.iter().flat_map(|element| element.law.values()) {
            value.for_each_symbol(&mut |symbol| {
                if chosen(symbol) && self[symbol].nominal.is_none() && missing.is_none() {
                    missing = Some(symbol);
                }
            });
        }
        if let Some(symbol) = missing {
            return Err(symbol);
        }
        let mut changed = self.clone();
        let replace = |symbol: SymbolId| match &self[symbol].nominal {
            Some(number) if chosen(symbol) => Some(Value::Number(number.clone())),
            _ => None,
        };
        for value in changed.elements.iter_mut().flat_map(|element| element.law.values_mut()) {
            *value = value.replaced(&replace);
        }
        Ok(changed)
    }
}
