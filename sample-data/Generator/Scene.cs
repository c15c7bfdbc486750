namespace SampleDay;

/// <summary>The apparatus as nature uses it, SI units. Nothing here knows how the program analyses it.</summary>
public sealed record Scene
{
    public double Mass { get; init; } = 106.90402 * 1.66053906892e-27;
    public double Wavelength { get; init; } = 663.3e-9;
    public double Linewidth { get; init; } = 6.60e6;
    public int GroundLevels { get; init; } = 12;
    public int ExcitedLevels { get; init; } = 4;
    /// <summary>Mean photons before a molecule goes dark.</summary>
    public double PhotonLimit { get; init; } = 600;
    public double SourceToProbe { get; init; } = 0.82;
    public double SourceToEntrance { get; init; } = 0.12;
    public double DeceleratorLength { get; init; } = 0.45;
    public int Stages { get; init; } = 45;
    /// <summary>Stages that remove energy; the others do nothing.</summary>
    public int WorkingStages { get; init; } = 45;
    /// <summary>J; 45 GHz times the Planck constant.</summary>
    public double EnergyPerStage { get; init; } = 45e9 * 6.62607015e-34;
    public double EmissionDelay { get; init; } = 90e-6;
    public double EmissionWidth { get; init; } = 15e-6;
    public double EmissionTail { get; init; } = 45e-6;
    public double SourceSize { get; init; } = 0.8e-3;
    public double TransverseSpeed { get; init; } = 0.5;
    public double Acceptance { get; init; } = 4e-3;
    public double ProbeWidth { get; init; } = 2.00e-3;
    public double Saturation { get; init; } = 1.10;
    /// <summary>Between laser and beam, rad.</summary>
    public double Angle { get; init; } = Math.PI / 2;
    /// <summary>Each molecule is in the level of one line: offset, Hz, and share.</summary>
    public (double Offset, double Share)[] Lines { get; init; } = [(0, 1)];
    /// <summary>What the laser reads on the line, Hz.</summary>
    public double AxisZero { get; init; }
    /// <summary>Rms, from shot to shot, Hz.</summary>
    public double LaserJitter { get; init; } = 0.6e6;
    public double Efficiency { get; init; } = 1.60e-3;
    public double DeadTime { get; init; } = 45e-9;
    /// <summary>Counts a second for 1 V of probe light.</summary>
    public double ScatterRate { get; init; } = 1800;
    public double DarkRate { get; init; } = 90;
    /// <summary>Counts for 1 V of ablation light, and decay times.</summary>
    public double[] FlashCounts { get; init; } = [50, 5];
    public double[] FlashTimes { get; init; } = [70e-6, 1.0e-3];
    public double ProbeMonitorZero { get; init; } = 0.015;
    public double AblationMonitorZero { get; init; } = 0.040;

    public double DeceleratorExit => SourceToEntrance + DeceleratorLength;
}

/// <summary>A beam of emitted molecules: flux v^3 exp(-((v - u)/alpha)^2).</summary>
/// <param name="Emitted">Molecules a shot at mean yield.</param>
/// <param name="Drift">u, m/s.</param>
/// <param name="Width">alpha, m/s.</param>
public sealed record Beam(double Emitted, double Drift, double Width)
{
    /// <summary>A second beam that leaves in the same pulse; null: none.</summary>
    public Beam? Slower { get; init; }

    /// <summary>This beam, then the second one.</summary>
    public IEnumerable<Beam> Parts => Slower is { } slower ? [this, .. slower.Parts] : [this];
}
