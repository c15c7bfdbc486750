namespace Pipeline.Apparatus;

/// <summary>Time of flight as a function of the speed at the probe.</summary>
public abstract record FlightMap
{
    /// <summary>Name in the configuration.</summary>
    public abstract string Name { get; }

    /// <summary>Time from emission to the middle of the probe, s.</summary>
    /// <param name="speed">Speed at the probe, m/s, positive.</param>
    public abstract double TimeFor(double speed);

    /// <summary>Speed at emission of a molecule that has <paramref name="speed"/> at the probe, m/s.</summary>
    public abstract double InitialSpeed(double speed);
}

/// <summary>Constant speed all the way.</summary>
/// <param name="Length">Emission point to probe, m.</param>
public sealed record FreeFlight(double Length) : FlightMap
{
    public override string Name => "free";
    public override double TimeFor(double speed) => Length / speed;
    public override double InitialSpeed(double speed) => speed;
}

/// <summary>Drift, a section that removes the same energy at each stage, drift.</summary>
/// <remarks>Stage k of n removes its energy at the end of its share of the length, so a molecule that arrives with v had
/// v_k^2 = v^2 + 2 (n - k) dE/m after stage k. Every v &gt; 0 at the probe has one past; molecules that stop never arrive.</remarks>
public sealed record DeceleratedFlight : FlightMap
{
    readonly double _energyStep;

    /// <param name="sourceToEntrance">m.</param>
    /// <param name="length">First stage to exit, m.</param>
    /// <param name="exitToProbe">m.</param>
    /// <param name="stages">Number of stages.</param>
    /// <param name="energyPerStage">J.</param>
    /// <param name="mass">kg.</param>
    public DeceleratedFlight(double sourceToEntrance, double length, double exitToProbe, int stages, double energyPerStage, double mass)
    {
        SourceToEntrance = Guard.NotNegative(sourceToEntrance);
        Length = Guard.Positive(length);
        ExitToProbe = Guard.NotNegative(exitToProbe);
        Stages = Guard.Positive(stages);
        _energyStep = 2 * Guard.NotNegative(energyPerStage) / Guard.Positive(mass);
    }

    public double SourceToEntrance { get; }
    public double Length { get; }
    public double ExitToProbe { get; }
    public int Stages { get; }
    public override string Name => "decelerator";

    public override double TimeFor(double speed)
    {
        double time = ExitToProbe / speed;
        double step = Length / Stages;
        for (int left = 1; left <= Stages; left++) time += step / Math.Sqrt(speed * speed + left * _energyStep);
        return time + SourceToEntrance / InitialSpeed(speed);
    }

    public override double InitialSpeed(double speed) => Math.Sqrt(speed * speed + Stages * _energyStep);
}

/// <summary>No unique relation between arrival time and speed, for example where each molecule loses a random energy.</summary>
/// <remarks>Such signals are compared with folded predictions; a spectrum from arrival time is not determined.</remarks>
public sealed record AmbiguousFlight : FlightMap
{
    public override string Name => "not-unique";
    public override double TimeFor(double speed) => throw new InvalidOperationException("no unique flight time");
    public override double InitialSpeed(double speed) => throw new InvalidOperationException("no unique initial speed");
}
