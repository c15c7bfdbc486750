using Pipeline.Apparatus;
using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>species/NAME.toml to <see cref="Species"/>. Every constant names its source.</summary>
static class SpeciesReader
{
    public static Species Read(TomlTable root)
    {
        var sources = new Dictionary<string, string>(StringComparer.Ordinal);
        var constants = new SourcedConstants(root, sources);
        string name = root.Text("name");
        var (mass, wavelength, linewidth) = (constants.Required("mass", Dimension.Mass), constants.Required("wavelength", Dimension.Length), constants.Required("natural_linewidth", Dimension.Frequency));
        var (moment, limit) = (constants.Optional("magnetic_moment", Dimension.MagneticMoment), constants.Optional("photon_limit", Dimension.Fraction));
        int ground = root.Has("ground_levels") ? root.Whole("ground_levels", 1, 1000) : 1, excited = root.Has("excited_levels") ? root.Whole("excited_levels", 1, 1000) : 1;
        SpectralLine[] lines = [.. root.Tables("lines").Select(ReadLine)];
        if (root.OptionalTable("hyperfine") is { } hyperfine)
        {
            if (lines.Length > 0) throw root.Refuse("lines", "both [[lines]] and [hyperfine]", "one of them", "leave out the lines, or the constants that they follow from");
            lines = HyperfineReader.Read(hyperfine, sources);
        }
        root.RefuseUnknown();
        return root.Build(() => new Species
        {
            Name = name, Mass = mass, Wavelength = wavelength, NaturalLinewidth = linewidth, MagneticMoment = moment, PhotonLimit = limit,
            GroundLevels = ground, ExcitedLevels = excited, Lines = lines.Length > 0 ? lines : [new SpectralLine(0, 1)], Sources = sources,
        });
    }

    static SpectralLine ReadLine(TomlTable t)
    {
        var line = new SpectralLine(t.Quantity("offset", Dimension.Frequency).Value, t.Number("weight")) { FieldFactor = t.Has("g_m") ? t.Number("g_m") : null };
        t.RefuseUnknown();
        return line.Weight > 0 ? line : throw t.Refuse("weight", $"{line.Weight}", "a positive weight");
    }
}
