using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>What the detector records.</summary>
public enum DetectorKind
{
    /// <summary>Photon counts in each sample.</summary>
    Counting,
    /// <summary>Volts.</summary>
    Analog,
}

/// <summary>What a count does to the next one within the dead time.</summary>
public enum DeadTimeKind
{
    /// <summary>It is lost and changes nothing.</summary>
    NonParalysable,
    /// <summary>It is lost and begins the dead time anew.</summary>
    Paralysable,
}

/// <summary>Photons to recorded signal.</summary>
public sealed record Detector
{
    public required DetectorKind Kind { get; init; }
    /// <summary>Detected counts (or photo-electrons) for each photon that a molecule scatters: solid angle, optics, filter band and
    /// quantum efficiency together; in (0, 1]. The product of <see cref="EfficiencyFactors"/> where these are given.</summary>
    public required Measured Efficiency { get => EfficiencyFactors.Count > 0 ? EfficiencyFactor.Product(EfficiencyFactors) : field; init => field = Guard.Share(value); }
    /// <summary>What the efficiency is made of; empty where it is known as a whole.</summary>
    public IReadOnlyList<EfficiencyFactor> EfficiencyFactors
    {
        get;
        init
        {
            if (value.Count > 0) Guard.Share(EfficiencyFactor.Product(value));
            field = value;
        }
    } = [];
    public DeadTimeKind DeadTimeKind { get; init; }
    /// <summary>s; 0 where none is known.</summary>
    public Measured DeadTime { get; init => field = Guard.NotNegative(value); }
    /// <summary>Volt-seconds for each photo-electron; analog only, then required.</summary>
    public Measured? VoltSecondPerElectron { get; init => field = value is { } g ? Guard.Positive(g) : null; }
    /// <summary>1/e time of the detector's bandwidth (one pole), s; 0 where it does not matter.</summary>
    public Measured TimeConstant { get; init => field = Guard.NotNegative(value); }
    /// <summary>1/e time of the coupling capacitor (one high-pass pole), s; 0 where the detector is coupled directly.</summary>
    public Measured CouplingTime { get; init => field = Guard.NotNegative(value); }
    /// <summary>Mean square over squared mean of the charge of one photo-electron; 1 where all are alike.</summary>
    public Measured ExcessNoise { get; init => field = Guard.Positive(value); } = new(1);
    /// <summary>Reading of the probe monitor without light, V.</summary>
    public Measured ProbeMonitorZero { get; init; }
    /// <summary>Reading of the ablation monitor without a pulse, V.</summary>
    public Measured AblationMonitorZero { get; init; }
    /// <summary>Relative noise of one reading of the probe monitor: how far it is from the light that scatters.</summary>
    public double ProbeMonitorNoise { get; init => field = Guard.NotNegative(value); }
    /// <summary>Relative noise of one reading of the ablation monitor: how far it is from the molecules and the flash it stands for.</summary>
    public double AblationMonitorNoise { get; init => field = Guard.NotNegative(value); }

    /// <summary>With another value of one factor of the efficiency.</summary>
    public Detector WithFactor(string name, Measured value) => this with { EfficiencyFactors = [.. EfficiencyFactors.Select(f => f.Name == name ? f with { Value = value } : f)] };

    /// <summary>With the efficiency times a number; its uncertainty stays.</summary>
    public Detector Scaled(double by) => EfficiencyFactors.Count > 0
        ? this with { EfficiencyFactors = [EfficiencyFactors[0] with { Value = new(EfficiencyFactors[0].Value.Value * by, EfficiencyFactors[0].Value.Sigma) }, .. EfficiencyFactors.Skip(1)] }
        : this with { Efficiency = new(Efficiency.Value * by, Efficiency.Sigma) };
}
