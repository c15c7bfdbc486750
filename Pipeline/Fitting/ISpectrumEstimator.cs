using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>A way from signal and response to a spectrum.</summary>
interface ISpectrumEstimator
{
    /// <summary>Name in the configuration.</summary>
    string Name { get; }

    FittedSpectrum Fit(FitWindow window, ResponseMatrix response);
}

/// <summary>A fit, and the way to repeat it on data or a response that differ a little.</summary>
abstract class FittedSpectrum
{
    /// <summary>[cells] molecules a shot.</summary>
    public required double[] Molecules { get; init; }
    /// <summary>Number, mean and spread as this estimator quotes them.</summary>
    public required SpectrumMoments Moments { get; init; }
    /// <summary>[window bins] expected totals with background and fitted causes.</summary>
    public required double[] Means { get; init; }
    public required double Deviance { get; init; }
    /// <summary>Bins less effective parameters.</summary>
    public required double DegreesOfFreedom { get; init; }
    /// <summary>Why the fit is not to be trusted; null where it is.</summary>
    public string? Doubt { get; init; }
    /// <summary>Why this estimator has no answer here; null where it has.</summary>
    public string? Refusal { get; init; }
    /// <summary>Why the spread is not quoted although number and mean are; null where it is.</summary>
    public string? NoSpread { get; init; }
    /// <summary>What was chosen or found, for the report.</summary>
    public required string Description { get; init; }
    /// <summary>[cells][cells] how a true spectrum appears; null where the estimator has none.</summary>
    public double[][]? Resolution { get; init; }
    /// <summary>What the spectrum is made from; empty where it has no parameters of meaning.</summary>
    public IReadOnlyList<ShapeParameter> Parameters { get; init; } = [];
    /// <summary>Every family that was fitted; empty where there are none.</summary>
    public IReadOnlyList<ShapeChoice> Choices { get; init; } = [];

    /// <summary>The result from other data, or another response, with everything chosen as in this fit.</summary>
    public abstract Refitted Refit(FitWindow window, ResponseMatrix response);
}

/// <summary>What a repeated fit gives.</summary>
/// <param name="Molecules">[cells] molecules a shot.</param>
/// <param name="Moments">Number, mean and spread as this estimator quotes them.</param>
readonly record struct Refitted(double[] Molecules, SpectrumMoments Moments);

/// <summary>Every estimator. To add one, write its file and add its line.</summary>
static class SpectrumEstimators
{
    /// <summary>With these settings.</summary>
    public static IReadOnlyList<ISpectrumEstimator> For(string shape, double shapePower) => [new UnfoldedEstimator(), new ShapeEstimator(shape, shapePower), new DirectEstimator()];

    /// <summary>With the settings that hold where nothing is said.</summary>
    public static IReadOnlyList<ISpectrumEstimator> All { get; } = For(FitSettings.UsualShape, FitSettings.UsualShapePower);

    public static ISpectrumEstimator Named(string name) =>
        All.FirstOrDefault(m => m.Name == name) ?? throw new ArgumentOutOfRangeException(nameof(name), name, $"must be one of {string.Join(", ", All.Select(m => m.Name))}");
}
