namespace Pipeline.Quantities;

/// <summary>What a quantity measures; decides which units are accepted for it.</summary>
public enum Dimension
{
    /// <summary>Plain number; "%" is accepted.</summary>
    Fraction,
    Length,
    Time,
    Mass,
    Speed,
    Frequency,
    /// <summary>Events a second; "1/s".</summary>
    Rate,
    Angle,
    /// <summary>Joule; also GHz and cm^-1 (times h), K (times k), eV.</summary>
    Energy,
    Voltage,
    MagneticField,
    /// <summary>J/T; also "mu_B".</summary>
    MagneticMoment,
    Temperature,
    /// <summary>Charge-like calibration of an analog detector, V s for each photo-electron.</summary>
    VoltSecond,
}
