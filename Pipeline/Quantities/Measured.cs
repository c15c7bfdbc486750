using System.Globalization;

namespace Pipeline.Quantities;

/// <summary>A quantity in SI units with its one-sigma standard uncertainty.</summary>
public readonly record struct Measured
{
    /// <param name="value">SI units; finite.</param>
    /// <param name="sigma">Same unit; finite, not negative; 0 where the quantity counts as exact.</param>
    /// <exception cref="ArgumentOutOfRangeException">A part is not finite or the uncertainty is negative.</exception>
    public Measured(double value, double sigma = 0)
    {
        if (!double.IsFinite(value)) throw new ArgumentOutOfRangeException(nameof(value), value, "must be finite");
        if (!double.IsFinite(sigma) || sigma < 0) throw new ArgumentOutOfRangeException(nameof(sigma), sigma, "must be finite and >= 0");
        Value = value;
        Sigma = sigma;
    }

    public double Value { get; }
    public double Sigma { get; }

    /// <summary>The same quantity moved by k of its own standard uncertainties; the uncertainty stays.</summary>
    public Measured Shifted(double k) => new(Value + k * Sigma, Sigma);

    public override string ToString() =>
        string.Create(CultureInfo.InvariantCulture, $"{Value:G6} ± {Sigma:G2}");
}
