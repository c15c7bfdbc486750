namespace Pipeline.Quantities;

/// <summary>Every unit the program knows, with its value in SI units. The only place where units are converted.</summary>
static class UnitTable
{
    const double Degree = Math.PI / 180;
    const double Hertz = Codata.PlanckConstant;

    static readonly Dictionary<Dimension, Dictionary<string, double>> Units = new()
    {
        [Dimension.Fraction] = Of(("", 1), ("%", 0.01)),
        [Dimension.Length] = Of(("m", 1), ("cm", 1e-2), ("mm", 1e-3), ("um", 1e-6), ("nm", 1e-9)),
        [Dimension.Time] = Of(("s", 1), ("ms", 1e-3), ("us", 1e-6), ("ns", 1e-9), ("ps", 1e-12)),
        [Dimension.Mass] = Of(("kg", 1), ("u", Codata.AtomicMassConstant)),
        [Dimension.Speed] = Of(("m/s", 1), ("cm/s", 1e-2), ("km/s", 1e3)),
        [Dimension.Frequency] = Of(("Hz", 1), ("kHz", 1e3), ("MHz", 1e6), ("GHz", 1e9), ("THz", 1e12)),
        [Dimension.Rate] = Of(("1/s", 1), ("1/ms", 1e3), ("1/us", 1e6)),
        [Dimension.Angle] = Of(("rad", 1), ("mrad", 1e-3), ("deg", Degree)),
        [Dimension.Energy] = Of(("J", 1), ("Hz", Hertz), ("kHz", 1e3 * Hertz), ("MHz", 1e6 * Hertz), ("GHz", 1e9 * Hertz), ("THz", 1e12 * Hertz),
            ("cm^-1", 100 * Codata.SpeedOfLight * Hertz), ("K", Codata.BoltzmannConstant), ("mK", 1e-3 * Codata.BoltzmannConstant),
            ("eV", Codata.ElementaryCharge), ("meV", 1e-3 * Codata.ElementaryCharge)),
        [Dimension.Voltage] = Of(("V", 1), ("mV", 1e-3), ("uV", 1e-6)),
        [Dimension.MagneticField] = Of(("T", 1), ("mT", 1e-3), ("G", 1e-4)),
        [Dimension.MagneticMoment] = Of(("J/T", 1), ("mu_B", Codata.BohrMagneton)),
        [Dimension.Temperature] = Of(("K", 1), ("mK", 1e-3)),
        [Dimension.VoltSecond] = Of(("V s", 1), ("mV s", 1e-3), ("V us", 1e-6), ("V ns", 1e-9), ("mV us", 1e-9), ("mV ns", 1e-12)),
    };

    /// <summary>The value of one unit in SI units, if this dimension has it.</summary>
    public static bool TryFind(Dimension dimension, string unit, out double factor) =>
        Units[dimension].TryGetValue(unit.Replace('µ', 'u').Replace('μ', 'u'), out factor);

    /// <summary>A value in SI units. Decimal fractions are divided by their whole inverse, so that 10 us is the double nearest to 1e-5 and
    /// not the one below it.</summary>
    public static double ToSi(double value, double factor)
    {
        double inverse = Math.Round(1 / factor);
        return factor < 1 && 1 / inverse == factor ? value / inverse : value * factor;
    }

    /// <summary>Units of a dimension, as they are typed.</summary>
    public static string Accepted(Dimension dimension) =>
        string.Join(", ", Units[dimension].Keys.Select(u => u.Length == 0 ? "no unit" : u));

    static Dictionary<string, double> Of(params (string, double)[] units) => units.ToDictionary(u => u.Item1, u => u.Item2, StringComparer.Ordinal);
}
