using Pipeline.Apparatus;
using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>The efficiency of a detector: as a whole, or by its factors in efficiency_from.</summary>
static class EfficiencyReader
{
    /// <param name="t">Table of the detector.</param>
    /// <returns>The efficiency, and its factors where they are stated.</returns>
    public static (Measured Efficiency, EfficiencyFactor[] Factors) Read(TomlTable t)
    {
        if (!t.Has("efficiency_from")) return (t.Quantity("efficiency", Dimension.Fraction), []);
        if (t.Has("efficiency")) throw t.Refuse("efficiency", "both efficiency and efficiency_from", "one of them", "state the efficiency once");
        TomlTable from = t.Table("efficiency_from");
        EfficiencyFactor[] factors = [.. Read(from, "collection", Collected(from)), .. EfficiencyFactor.Names.Skip(1).SelectMany(name => Read(from, name, from.OptionalQuantity(Key(name), Dimension.Fraction)))];
        from.RefuseUnknown();
        if (factors.Length == 0)
            throw t.Refuse("efficiency_from", "no factors", $"any of numerical_aperture, {string.Join(", ", EfficiencyFactor.Names.Skip(1).Select(Key))}", "state the factors, or the efficiency as a whole");
        Measured product = EfficiencyFactor.Product(factors);
        return product.Value <= 1 ? (product, factors) : throw t.Refuse("efficiency_from", $"a product of {product}", "an efficiency in (0, 1]", "correct the factors");
    }

    static EfficiencyFactor[] Read(TomlTable from, string name, Measured? value) =>
        value is { } stated ? [from.Build(() => new EfficiencyFactor(name, stated), Names("Value", Key(name)))] : [];

    static Measured? Collected(TomlTable from)
    {
        Measured? aperture = from.OptionalQuantity("numerical_aperture", Dimension.Fraction);
        if (!from.Has("lens_diameter") && !from.Has("lens_distance")) return aperture is { } na ? from.Build<Measured?>(() => CollectedShare.FromAperture(na), Names("aperture", "numerical_aperture")) : null;
        if (aperture is not null) throw from.Refuse("numerical_aperture", "both numerical_aperture and a lens", "one of them", "state once how much light is collected");
        var (diameter, distance) = (from.Quantity("lens_diameter", Dimension.Length), from.Quantity("lens_distance", Dimension.Length));
        if (!(diameter.Value > 0)) throw from.Refuse("lens_diameter", $"{diameter} m", "a positive length");
        return distance.Value > 0 ? CollectedShare.FromLens(diameter, distance) : throw from.Refuse("lens_distance", $"{distance} m", "a positive length");
    }

    static Dictionary<string, string> Names(string member, string key) => new(StringComparer.Ordinal) { [member] = key };

    static string Key(string name) => name.Replace(' ', '_');
}
