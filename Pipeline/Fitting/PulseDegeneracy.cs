using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>What an unknown emission pulse leaves open of the velocity: a longer pulse of faster molecules looks like a shorter one of slower
/// molecules.</summary>
/// <remarks>Every candidate pulse is unfolded, with no assumption on the spectrum. Those whose deviance is what noise allows (within three of
/// its standard deviations, sqrt(2 dof), of the degrees of freedom) describe the signal, and their mean velocities span what is not known.</remarks>
static class PulseDegeneracy
{
    const double Deviations = 3;

    /// <summary>Why the velocity is not determined, with the size of what is open.</summary>
    /// <param name="window">The signal.</param>
    /// <param name="emission">What is known of the pulse.</param>
    /// <param name="response">The response for a pulse.</param>
    public static string Describe(FitWindow window, UnknownEmission emission, Func<EmissionProfile, ResponseMatrix> response)
    {
        IReadOnlyList<EmissionProfile> candidates = emission.Candidates;
        var fits = new (EmissionProfile Pulse, double Mean, double Excess)[candidates.Count];
        Parallel.For(0, fits.Length, k =>
        {
            FittedSpectrum fit = SpectrumEstimators.Named("unfolded").Fit(window, response(candidates[k]));
            fits[k] = (candidates[k], fit.Moments.Mean, (fit.Deviance - fit.DegreesOfFreedom) / Math.Sqrt(2 * fit.DegreesOfFreedom));
        });
        (EmissionProfile Pulse, double Mean, double Excess)[] alike = [.. fits.Where(f => f.Excess <= Deviations && double.IsFinite(f.Mean))];
        if (alike.Length == 0)
            return string.Create(CultureInfo.InvariantCulture, $"the emission pulse is unknown, and none of {fits.Length} pulses up to {1e3 * emission.Longest.Value:G3} ms describes the signal; measure the pulse, a second distance or a Doppler scan");
        double[] ends = [.. alike.Select(f => 1e3 * f.Pulse.MeanTime)];
        return string.Create(CultureInfo.InvariantCulture, $"the emission pulse is unknown: pulses with a mean time of {ends.Min():G3} to {ends.Max():G3} ms describe the signal alike, with mean velocities of {alike.Min(f => f.Mean):F0} to {alike.Max(f => f.Mean):F0} m/s; measure the pulse, a second distance or a Doppler scan");
    }
}
