using System.Globalization;
using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>What the signal of a measured pulse counts.</summary>
public enum TemplateWeighting
{
    /// <summary>Molecules that cross a plane.</summary>
    Crossings,
    /// <summary>Molecules in a place, slow ones longer: absorption, weak fluorescence.</summary>
    Density,
}

/// <summary>A pulse that a channel near the source has measured, taken back to the emission point.</summary>
/// <remarks>A density signal is the crossing rate over v. Where speeds do not depend on the time of emission, p(v) comes out of the integral, and
/// at the emission point the density has the shape of the rate. Further on, each molecule is late by d/v: the signal is the pulse smeared with
/// the distribution of d/v, weighted by p for crossings and by p/v for a density. Its mean is d &lt;1/v&gt; or d &lt;1/v^2&gt;/&lt;1/v&gt;, to second
/// order in the relative spread r of the speeds d/u (1 + r^2) or d/u (1 + 2 r^2), and is taken off; its rms, r d/u to first order, is not (see
/// <see cref="Smear"/>). In a cell, the density stands for what leaves it only as long as the share that leaves a second does not change.</remarks>
public sealed record TemplateEmission : EmissionProfile
{
    /// <summary>Smear over width below which nothing is said: it widens the pulse by 3 %.</summary>
    const double SmallSmear = 0.25;

    /// <summary>As measured.</summary>
    public required PulseShape Shape { get; init; }
    public TemplateWeighting Weighting { get; init; }
    /// <summary>Emission point to the plane where the pulse was measured, m.</summary>
    public Measured Distance { get; init => field = Guard.NotNegative(value); }
    /// <summary>Mean speed of the emitted molecules there, m/s; not used at distance 0.</summary>
    public Measured MeanSpeed { get; init => field = Guard.Positive(value); } = new(1);
    /// <summary>Rms spread of their speeds, m/s.</summary>
    public Measured SpeedSpread { get; init => field = Guard.NotNegative(value); }
    /// <summary>Factor on the width about the mean time; its uncertainty is that of the width.</summary>
    public Measured Stretch { get; init => field = Guard.Positive(value); } = new(1);

    public override string Name => "template";
    public override double MeanTime => Delay.Value + Shape.Mean - Lag;
    public override (double Low, double High) Support => (Used(Shape.Start), Used(Shape.End));
    public override double CumulativeAt(double time) => Shape.ShareBefore(Recorded(time));
    public override double IntegratedCumulativeAt(double time) => Stretch.Value * Shape.IntegralBefore(Recorded(time));

    /// <summary>Mean flight from the emission point to the plane, as the signal weights it, s.</summary>
    public double Lag => Distance.Value / MeanSpeed.Value * (1 + (Weighting == TemplateWeighting.Density ? 2 : 1) * RelativeSpread * RelativeSpread);

    /// <summary>Rms of the flight times to the plane, s: by so much the measured pulse is wider than the emitted one, in quadrature.</summary>
    public double Smear => Distance.Value / MeanSpeed.Value * RelativeSpread;

    /// <summary>Rms width of the pulse as it is used, s.</summary>
    public double Width => Stretch.Value * Math.Sqrt(Shape.Variance());

    public override string? Remark => Smear > SmallSmear * Width ? string.Create(CultureInfo.InvariantCulture,
        $"doubt: where the emission pulse was measured, {1e3 * Distance.Value:G3} mm after the emission point, different speeds smear it by {1e6 * Smear:G3} us, and its rms width is {1e6 * Width:G3} us; only the mean flight is taken off: measure nearer to the source, or state a stretch below one") : null;

    /// <summary>The pulse as it is used.</summary>
    internal PulseShape AtSource() => Shape.With(MeanTime, Stretch.Value);

    double RelativeSpread => SpeedSpread.Value / MeanSpeed.Value;
    double Recorded(double time) => Shape.Mean + (time - MeanTime) / Stretch.Value;
    double Used(double recorded) => MeanTime + Stretch.Value * (recorded - Shape.Mean);
}
