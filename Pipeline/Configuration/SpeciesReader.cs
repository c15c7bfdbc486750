using Pipeline.Apparatus;
using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>species/NAME.toml to <see cref="Species"/>. Every constant names its source.</summary>
static class SpeciesReader
{
    public static Species Read(TomlTable root)
    {
        var sources = new Dictionary<string, string>(StringComparer.Ordinal);
        Measured Sourced(string key, Dimension dimension)
        {
            if (!root.IsTable(key)) throw root.Refuse(key, root.Has(key) ? "a value without source" : "no such key", $"{key} = {{ value = \"...\", source = \"...\" }}", "name where the constant was published");
            TomlTable constant = root.Table(key);
            Measured value = constant.Quantity("value", dimension);
            sources[key] = constant.Text("source");
            constant.RefuseUnknown();
            if (string.IsNullOrWhiteSpace(sources[key])) throw constant.Refuse("source", "an empty source", "where the constant was published", "name it");
            return value;
        }
        Measured? Optional(string key, Dimension dimension) => root.Has(key) ? Sourced(key, dimension) : null;
        string name = root.Text("name");
        var (mass, wavelength, linewidth) = (Sourced("mass", Dimension.Mass), Sourced("wavelength", Dimension.Length), Sourced("natural_linewidth", Dimension.Frequency));
        var (moment, limit) = (Optional("magnetic_moment", Dimension.MagneticMoment), Optional("photon_limit", Dimension.Fraction));
        int ground = root.Has("ground_levels") ? root.Whole("ground_levels", 1, 1000) : 1, excited = root.Has("excited_levels") ? root.Whole("excited_levels", 1, 1000) : 1;
        SpectralLine[] lines = [.. root.Tables("lines").Select(ReadLine)];
        root.RefuseUnknown();
        return root.Build(() => new Species
        {
            Name = name, Mass = mass, Wavelength = wavelength, NaturalLinewidth = linewidth, MagneticMoment = moment, PhotonLimit = limit,
            GroundLevels = ground, ExcitedLevels = excited, Lines = lines.Length > 0 ? lines : [new SpectralLine(0, 1)], Sources = sources,
        });
    }

    static SpectralLine ReadLine(TomlTable t)
    {
        var line = new SpectralLine(t.Quantity("offset", Dimension.Frequency).Value, t.Number("weight"));
        t.RefuseUnknown();
        return line.Weight > 0 ? line : throw t.Refuse("weight", $"{line.Weight}", "a positive weight");
    }
}
