using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>One of the factors of an efficiency.</summary>
public sealed record EfficiencyFactor
{
    /// <param name="name">One of <see cref="Names"/>.</param>
    /// <param name="value">In (0, 1]; the anisotropy only positive, because light may prefer the lens.</param>
    public EfficiencyFactor(string name, Measured value)
    {
        Name = name;
        Value = value;
    }

    /// <summary>In the order of the light.</summary>
    public static IReadOnlyList<string> Names { get; } = ["collection", "transmission", "filter band", "anisotropy", "quantum efficiency", "counting efficiency"];

    public string Name { get; }
    public Measured Value { get; init => field = Name == "anisotropy" ? Guard.Positive(value) : Guard.Share(value); }

    /// <summary>The product. Independent relative uncertainties add up in squares, as uncertainties of logarithms do.</summary>
    public static Measured Product(IReadOnlyList<EfficiencyFactor> factors)
    {
        double value = factors.Aggregate(1.0, (p, f) => p * f.Value.Value);
        return new Measured(value, value * Math.Sqrt(factors.Sum(f => Math.Pow(f.Value.Sigma / f.Value.Value, 2))));
    }
}
