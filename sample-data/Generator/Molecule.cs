namespace SampleDay;

/// <summary>One molecule on its way.</summary>
/// <param name="Time">s after the ablation pulse.</param>
/// <param name="Z">Distance from the source, m.</param>
/// <param name="Speed">Along the beam, m/s.</param>
public readonly record struct Molecule(double Time, double Z, double Speed, double X, double Y, double Vx, double Vy)
{
    /// <summary>The same molecule further along, in free flight.</summary>
    public Molecule At(double z)
    {
        double flight = (z - Z) / Speed;
        return this with { Time = Time + flight, Z = z, X = X + Vx * flight, Y = Y + Vy * flight };
    }
}

/// <summary>Molecules from the source to a plane.</summary>
public static class Flight
{
    /// <summary>A molecule as it leaves the source.</summary>
    public static Molecule Emit(Scene scene, Beam beam, Draw draw) => new(
        scene.EmissionDelay + scene.EmissionWidth * draw.Normal() + scene.EmissionTail * draw.Exponential(), 0, draw.FluxSpeed(beam.Drift, beam.Width),
        scene.SourceSize * draw.Normal(), scene.SourceSize * draw.Normal(), scene.TransverseSpeed * draw.Normal(), scene.TransverseSpeed * draw.Normal());

    /// <summary>The molecule at the exit of the decelerator; null where it stops inside.</summary>
    public static Molecule? ThroughDecelerator(Scene scene, Molecule start, bool on)
    {
        if (!on) return start.At(scene.DeceleratorExit);
        Molecule at = start.At(scene.SourceToEntrance);
        double step = scene.DeceleratorLength / scene.Stages;
        for (int stage = 1; stage <= scene.Stages; stage++)
        {
            at = at.At(scene.SourceToEntrance + stage * step);
            double removed = stage <= scene.WorkingStages ? scene.EnergyPerStage : 0, square = at.Speed * at.Speed - 2 * removed / scene.Mass;
            if (square <= 0) return null;
            at = at with { Speed = Math.Sqrt(square) };
        }
        return at;
    }

    /// <summary>The molecule at the probe; null where it stops or passes outside the acceptance.</summary>
    public static Molecule? ToProbe(Scene scene, Molecule start, bool on)
    {
        if (ThroughDecelerator(scene, start, on) is not { } exit) return null;
        Molecule at = exit.At(scene.SourceToProbe);
        return Math.Abs(at.X) <= scene.Acceptance && Math.Abs(at.Y) <= scene.Acceptance ? at : null;
    }
}
