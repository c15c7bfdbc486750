using Pipeline.Backgrounds;
using Pipeline.Quantities;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>What one estimator found.</summary>
public sealed record VelocitySpectrum
{
    public required string Estimator { get; init; }
    public required string Description { get; init; }
    public required VelocityGrid Grid { get; init; }
    /// <summary>[cells] molecules a shot that cross the probe; divide by the step for dN/dv.</summary>
    public required double[] Molecules { get; init; }
    /// <summary>[cells] standard error from the scatter between blocks of shots.</summary>
    public required double[] Statistical { get; init; }
    /// <summary>[cells] standard error from all common causes.</summary>
    public required double[] Systematic { get; init; }
    /// <summary>[bins] the spectrum folded back, molecules only, counts a shot, dead time undone; NaN outside the fit window.</summary>
    public required double[] Refolded { get; init; }
    /// <summary>[cells][cells] how a true spectrum appears in <see cref="Molecules"/>; null where the estimator has none.</summary>
    public double[][]? Resolution { get; init; }
    public required double Deviance { get; init; }
    public required double DegreesOfFreedom { get; init; }
    /// <summary>Why it is not to be trusted; null where it is.</summary>
    public string? Doubt { get; init; }
    /// <summary>What the spectrum is made from; empty where it has no parameters of meaning.</summary>
    public IReadOnlyList<ShapeParameter> Parameters { get; init; } = [];
    /// <summary>Every family that was fitted; empty where there are none.</summary>
    public IReadOnlyList<ShapeChoice> Choices { get; init; } = [];
    public required Quantity Number { get; init; }
    public required Quantity Mean { get; init; }
    public required Quantity Spread { get; init; }
}

/// <summary>The number below the capture velocity.</summary>
/// <param name="CaptureSpeed">m/s.</param>
/// <param name="Value">Molecules a shot; unbiased, and so negative where the background fluctuates up; NaN where not determined.</param>
/// <param name="Interval">With systematics; null where not determined.</param>
/// <param name="NotDeterminedBecause">Null where the value stands.</param>
public sealed record BelowCapture(double CaptureSpeed, double Value, Interval? Interval, string? NotDeterminedBecause = null)
{
    /// <summary>How the interval was found.</summary>
    public string Rule { get; init; } = "";

    /// <summary>Share of all molecules that are below, at the same confidence; null where the number is not clear.</summary>
    public Interval? Share { get; init; }

    /// <summary>Smallest and largest number over all non-negative spectra that the data allow, at the same confidence; what moves all
    /// numbers alike is added to both ends, not in squares; null where not determined.</summary>
    public Interval? Strict { get; init; }
}

/// <summary>A quantity with its name and unit.</summary>
public sealed record NamedQuantity(string Name, string Unit, Quantity Quantity);

/// <summary>All that the fits tell of one condition.</summary>
public sealed record SpectrumOutcome
{
    public required NetSignal Signal { get; init; }
    /// <summary>Name of the flight map.</summary>
    public required string Flight { get; init; }
    /// <summary>The quoted one first; empty where not determined.</summary>
    public required IReadOnlyList<VelocitySpectrum> Spectra { get; init; }
    public required BelowCapture Below { get; init; }
    /// <summary>Why there is no spectrum; null where there is one.</summary>
    public string? NotDeterminedBecause { get; init; }
    /// <summary>Standard error of the mean yield beyond counting, relative: shots differ by more than their Poisson noise.</summary>
    public required double YieldScatter { get; init; }
    /// <summary>Degrees of freedom of <see cref="YieldScatter"/>: blocks of signal shots less one.</summary>
    public required int YieldFreedom { get; init; }
    public IReadOnlyList<string> Remarks { get; init; } = [];
    /// <summary>Quantities beside number, mean and spread.</summary>
    public IReadOnlyList<NamedQuantity> Others { get; init; } = [];
    /// <summary>[bins] a fit that is no spectrum, counts a shot; null where there is none.</summary>
    public double[]? Fitted { get; init; }

    public Quantity Number => Quoted(s => s.Number);
    public Quantity Mean => Quoted(s => s.Mean);
    public Quantity Spread => Quoted(s => s.Spread);

    Quantity Quoted(Func<VelocitySpectrum, Quantity> of) =>
        Spectra.Count > 0 ? of(Spectra[0]) : Quantity.NotDetermined(NotDeterminedBecause ?? "no spectrum");
}
