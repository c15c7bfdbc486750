using Pipeline.Apparatus;
using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>[hyperfine] of a species to its lines. One excited level is assumed whose own structure is not resolved.</summary>
static class HyperfineReader
{
    public static SpectralLine[] Read(TomlTable t, Dictionary<string, string> sources)
    {
        var constants = new SourcedConstants(t, sources);
        double Hertz(string key) => constants.Required(key, Dimension.Frequency).Value;
        if (t.Has("fermi_b") == t.Has("fermi_contact"))
            throw t.Refuse(t.Has("fermi_b") ? "fermi_contact" : "fermi_b", t.Has("fermi_b") ? "both fermi_b and fermi_contact" : "neither fermi_b nor fermi_contact", "one of them",
                "state fermi_b for b, or fermi_contact for b_F = b + c/3, as your source defines it");
        double rotation = Hertz("rotational_constant"), spin = Hertz("spin_rotation"), dipolar = Hertz("dipolar_c");
        double b = t.Has("fermi_b") ? Hertz("fermi_b") : HyperfineConstants.FermiBOf(Hertz("fermi_contact"), dipolar);
        double nuclear = constants.Optional("nuclear_spin_rotation", Dimension.Frequency)?.Value ?? 0;
        int level = t.Whole("level", 0, 1000);
        double? spread = t.Has("g_m_spread") ? t.Number("g_m_spread") : null;
        if (spread < 0) throw t.Refuse("g_m_spread", $"{spread:G4}", "0 or more: lines are split to both sides by it");
        t.RefuseUnknown();
        SpectralLine[] lines = t.Build(() => HyperfineLevels.Lines(HyperfineLevels.Of(new HyperfineConstants
        {
            RotationalConstant = rotation, SpinRotation = spin, FermiB = b, DipolarC = dipolar, NuclearSpinRotation = nuclear,
        }, level)));
        return [.. lines.Select(l => l with { FieldFactor = spread, Mixed = spread is not null })];
    }
}
