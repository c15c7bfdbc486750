using Pipeline.Apparatus;
using Pipeline.Quantities;

namespace Pipeline.Fitting;

/// <summary>Quantities of a spectrum beside number, mean and spread.</summary>
/// <remarks>Quantiles and the peak of the spectrum are not offered: over 100 made-up runs the median was a third to two thirds of its standard
/// error too low, whichever of the spectra it was taken from.</remarks>
static class OtherQuantities
{
    /// <param name="fit">The quoted estimator.</param>
    /// <param name="setup">For the mass.</param>
    /// <param name="weak">Why nothing but the number is quoted; null where the signal is clear.</param>
    public static IReadOnlyList<NamedQuantity> Of(EstimatorRun fit, Setup setup, string? weak) =>
    [
        new("forward temperature", "K", weak is not null ? Quantity.NotDetermined(weak)
            : fit.Quantity(r => setup.Species.Mass.Value * r.Moments.Spread * r.Moments.Spread / Codata.BoltzmannConstant)),
    ];
}
