using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>A fact of the apparatus that is known only within its uncertainty, and moves every result that rests on it.</summary>
/// <param name="Name">As a physicist would say it.</param>
/// <param name="Value">The fact in a setup; null where the setup has none.</param>
/// <param name="Replace">The setup with another value of it.</param>
public sealed record Nuisance(string Name, Func<Setup, Measured?> Value, Func<Setup, Measured, Setup> Replace)
{
    /// <summary>Whether it scales every signal alike, and so moves numbers only.</summary>
    public bool ScalesOnly { get; init; }

    /// <summary>The setup with this fact moved by k of its own standard uncertainties.</summary>
    public Setup Shift(Setup setup, double k) =>
        Value(setup) is { } value ? Replace(setup, value.Shifted(k)) : setup;
}

/// <summary>Every nuisance of an apparatus. To add one, add its line.</summary>
public static class Nuisances
{
    static readonly Nuisance[] All =
    [
        new("flight length", s => s.Beamline.SourceToProbe, (s, m) => s with { Beamline = s.Beamline with { SourceToProbe = m } }),
        new("trigger offset", s => s.Beamline.TriggerOffset, (s, m) => s with { Beamline = s.Beamline with { TriggerOffset = m } }),
        new("decelerator entrance", s => s.Beamline.Decelerator?.SourceToEntrance,
            (s, m) => WithDecelerator(s, d => d with { SourceToEntrance = m })),
        new("decelerator length", s => s.Beamline.Decelerator?.Length, (s, m) => WithDecelerator(s, d => d with { Length = m })),
        new("energy per stage", s => s.Beamline.Decelerator?.EnergyPerStage,
            (s, m) => WithDecelerator(s, d => d with { EnergyPerStage = m })),
        new("emission delay", s => s.Emission.Delay, (s, m) => s with { Emission = s.Emission with { Delay = m } }),
        new("emission width", s => EmissionWidth(s.Emission), (s, m) => s with { Emission = WithWidth(s.Emission, m) }),
        new("emission tail", s => EmissionTail(s.Emission), (s, m) => s with { Emission = WithTail(s.Emission, m) }),
        new("emission shape", s => (s.Emission as GammaEmission)?.Shape, (s, m) => With<GammaEmission>(s, g => g with { Shape = m })),
        new("emission scale", s => (s.Emission as GammaEmission)?.Scale, (s, m) => With<GammaEmission>(s, g => g with { Scale = m })),
        new("emission stretch", s => (s.Emission as TemplateEmission)?.Stretch, (s, m) => With<TemplateEmission>(s, t => t with { Stretch = m })),
        new("template distance", s => (s.Emission as TemplateEmission)?.Distance, (s, m) => With<TemplateEmission>(s, t => t with { Distance = m })),
        new("template mean speed", s => Flown(s)?.MeanSpeed, (s, m) => With<TemplateEmission>(s, t => t with { MeanSpeed = m })),
        new("template speed spread", s => Flown(s)?.SpeedSpread, (s, m) => With<TemplateEmission>(s, t => t with { SpeedSpread = m })),
        new("level share", s => s.LevelShare, (s, m) => s with { LevelShare = m }) { ScalesOnly = true },
        new("efficiency", s => s.Detector.EfficiencyFactors.Count == 0 ? s.Detector.Efficiency : null, (s, m) => s with { Detector = s.Detector with { Efficiency = m } }) { ScalesOnly = true },
        .. EfficiencyFactor.Names.Select(name => new Nuisance(name, s => s.Detector.EfficiencyFactors.FirstOrDefault(f => f.Name == name)?.Value,
            (s, m) => s with { Detector = s.Detector.WithFactor(name, m) }) { ScalesOnly = true }),
        new("detector time constant", s => s.Detector.TimeConstant, (s, m) => s with { Detector = s.Detector with { TimeConstant = m } }),
        new("coupling time", s => s.Detector.CouplingTime, (s, m) => s with { Detector = s.Detector with { CouplingTime = m } }),
        // a response in photo-electrons cannot tell gain from efficiency
        new("gain", s => s.Detector.VoltSecondPerElectron is { } g ? new Measured(1, g.Sigma / g.Value) : null,
            (s, m) => s with { Detector = s.Detector.Scaled(m.Value) }) { ScalesOnly = true },
        new("probe width", s => s.Probe.Width, (s, m) => s with { Probe = s.Probe with { Width = m } }),
        new("probe angle", s => s.Probe.Angle, (s, m) => s with { Probe = s.Probe with { Angle = m } }),
        new("probe detuning", s => s.Probe.Detuning, (s, m) => s with { Probe = s.Probe with { Detuning = m } }),
        new("frequency zero", s => s.Probe.AxisZero, (s, m) => s with { Probe = s.Probe with { AxisZero = m } }),
        new("axis drift", s => s.Probe.AxisDrift, (s, m) => s with { Probe = s.Probe with { AxisDrift = m } }),
        new("residual field", s => s.Probe.Field, (s, m) => s with { Probe = s.Probe with { Field = m } }),
        new("saturation", s => s.Probe.Saturation, (s, m) => s with { Probe = s.Probe with { Saturation = m } }),
        new("scattering rate", s => s.Probe.ScatteringRate, (s, m) => s with { Probe = s.Probe with { ScatteringRate = m } }),
        new("natural linewidth", s => s.Species.NaturalLinewidth, (s, m) => s with { Species = s.Species with { NaturalLinewidth = m } }),
        new("photon limit", s => s.Species.PhotonLimit, (s, m) => s with { Species = s.Species with { PhotonLimit = m } }),
    ];

    /// <summary>The nuisances of this setup that have an uncertainty.</summary>
    public static IReadOnlyList<Nuisance> Of(Setup setup) => [.. All.Where(n => n.Value(setup) is { Sigma: > 0 })];

    static Setup WithDecelerator(Setup s, Func<Decelerator, Decelerator> change) =>
        s.Beamline.Decelerator is { } d ? s with { Beamline = s.Beamline with { Decelerator = change(d) } } : s;

    static Setup With<T>(Setup s, Func<T, T> change) where T : EmissionProfile => s.Emission is T pulse ? s with { Emission = change(pulse) } : s;

    static TemplateEmission? Flown(Setup s) => s.Emission is TemplateEmission { Distance.Value: > 0 } template ? template : null;

    static Measured? EmissionWidth(EmissionProfile emission) => emission switch
    {
        GaussianEmission g => g.Width,
        ExponentialGaussianEmission e => e.Width,
        _ => null,
    };

    static EmissionProfile WithWidth(EmissionProfile emission, Measured width) => emission switch
    {
        GaussianEmission g => g with { Width = width },
        ExponentialGaussianEmission e => e with { Width = width },
        _ => emission,
    };

    static Measured? EmissionTail(EmissionProfile emission) => emission switch
    {
        ExponentialEmission x => x.Tail,
        ExponentialGaussianEmission e => e.Tail,
        _ => null,
    };

    static EmissionProfile WithTail(EmissionProfile emission, Measured tail) => emission switch
    {
        ExponentialEmission x => x with { Tail = tail },
        ExponentialGaussianEmission e => e with { Tail = tail },
        _ => emission,
    };
}
