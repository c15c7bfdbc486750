using Pipeline.Apparatus;
using Pipeline.Quantities;

namespace Pipeline.Tests.Support;

/// <summary>Small setups for tests.</summary>
static class TestSetups
{
    /// <summary>Free flight over one metre with perfect detection; density, flux or photons through the product of rate and width.</summary>
    /// <param name="emission">The pulse.</param>
    /// <param name="rateTimesWidth">Scattering rate times width of the light, m/s.</param>
    /// <param name="photonLimit">Null: no limit.</param>
    public static Setup OneMetre(EmissionProfile emission, double rateTimesWidth, double? photonLimit)
    {
        const double Width = 1e-7; // so thin that transit does not smear
        return new Setup
        {
            Species = new Species
            {
                Name = "test", Mass = new(59 * Codata.AtomicMassConstant), Wavelength = new(600e-9), NaturalLinewidth = new(8e6),
                PhotonLimit = photonLimit is { } limit ? new Measured(limit) : null,
            },
            Beamline = new Beamline { SourceToProbe = new(1.0) },
            Probe = new Probe { Width = new(Width), ScatteringRate = new(rateTimesWidth / Width) },
            Detector = new Detector { Kind = DetectorKind.Counting, Efficiency = new(1) },
            Emission = emission,
            Conditions = new Dictionary<string, FlightKind>(StringComparer.Ordinal) { ["off"] = FlightKind.Free },
            CaptureSpeed = 24,
        };
    }
}
