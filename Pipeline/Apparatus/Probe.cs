using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>Shape of the probe light along the beam.</summary>
public enum ProbeShape
{
    /// <summary>Constant over its full width, zero outside.</summary>
    TopHat,
    /// <summary>Intensity exp(-2 z^2/w^2), w the 1/e^2 radius.</summary>
    Gaussian,
}

/// <summary>The probe laser where the beam crosses it.</summary>
public sealed record Probe
{
    public ProbeShape Shape { get; init; } = ProbeShape.TopHat;
    /// <summary>Full width of a top hat, or 1/e^2 radius of a Gaussian, m.</summary>
    public required Measured Width { get; init => field = Guard.Positive(value); }
    /// <summary>Emission point to the middle of this probe, m; null: that of the beam line.</summary>
    public Measured? SourceToProbe { get; init => field = value is { } d ? Guard.Positive(d) : null; }
    /// <summary>Angle between laser propagation and molecular velocity, rad.</summary>
    public Measured Angle { get; init; } = new(Math.PI / 2);
    /// <summary>Peak saturation parameter; null where <see cref="ScatteringRate"/> is given instead.</summary>
    public Measured? Saturation { get; init => field = value is { } s ? Guard.Positive(s) : null; }
    /// <summary>Peak scattering rate on resonance, 1/s; null where <see cref="Saturation"/> is given instead.</summary>
    public Measured? ScatteringRate { get; init => field = value is { } r ? Guard.Positive(r) : null; }
    /// <summary>Detuning of the laser from the line centroid, Hz.</summary>
    public Measured Detuning { get; init; }
    /// <summary>Laser reading of a scan at which the laser stands on the line centroid, Hz.</summary>
    public Measured AxisZero { get; init; }
    /// <summary>How far the laser moves up against its own reading from the first kept shot of a run to the last, evenly in shots, Hz;
    /// <see cref="AxisZero"/> is that of the middle.</summary>
    public Measured AxisDrift { get; init; }
    /// <summary>Residual magnetic field where the beam crosses the light, T; of either sign.</summary>
    public Measured Field { get; init; }
    /// <summary>Rms jitter of the laser, Hz; part of <see cref="DetuningSpread"/>.</summary>
    public Measured LaserJitter { get; init => field = Guard.NotNegative(value); }
    /// <summary>Rms width of all that spreads the detuning between molecules or shots, apart from their speed along the beam:
    /// laser jitter and transverse Doppler shifts, Hz.</summary>
    public Measured DetuningSpread { get; init => field = Guard.NotNegative(value); }

    /// <summary>What the laser would read without its drift, Hz.</summary>
    /// <param name="reading">Hz.</param>
    /// <param name="order">Place in the run, -0.5 first to 0.5 last.</param>
    public double Steady(double reading, double order) => reading + AxisDrift.Value * order;

    /// <summary>The same probe, this much brighter.</summary>
    public Probe WithLight(double times) => this with
    {
        Saturation = Saturation is { } s ? new Measured(s.Value * times, s.Sigma * times) : null,
        ScatteringRate = ScatteringRate is { } r ? new Measured(r.Value * times, r.Sigma * times) : null,
    };
}
