using Pipeline.Apparatus;
using Pipeline.Quantities;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Response;

public class DetectionYieldTests
{
    static Setup With(Probe probe, double? limit = null) => TestSetups.OneMetre(new InstantEmission(), 1, limit) with { Probe = probe };

    /// <remarks>n_max (1 - exp(-R T/n_max)), n_max = 50, R T = 28.57: 21.76328715, checked by this team against the exact counting
    /// distribution.</remarks>
    [Fact]
    public void PhotonsAt_Pumped_MatchesCountingDistribution()
    {
        Setup setup = With(new Probe { Width = new(1e-3), ScatteringRate = new(28.57e5) }, 50);
        Assert.Equal(21.76328715, new DetectionYield(setup).PhotonsAt(100), 8);
    }

    /// <remarks>Local exponent d ln n/d ln v = -x e^-x/(1 - e^-x): -0.995, -0.771, -0.582, -0.034 at x = 0.01, 0.5, 1, 5; recomputed by
    /// this team.</remarks>
    [Theory]
    [InlineData(0.01, -0.995)]
    [InlineData(0.5, -0.771)]
    [InlineData(1, -0.582)]
    [InlineData(5, -0.034)]
    public void PhotonsAt_BetweenDensityAndFlux_HasTheKnownExponent(double x, double exponent)
    {
        var yield = new DetectionYield(With(new Probe { Width = new(1e-3), ScatteringRate = new(x * 50 * 100 / 1e-3) }, 50));
        double slope = Math.Log(yield.PhotonsAt(100.1) / yield.PhotonsAt(99.9)) / Math.Log(100.1 / 99.9);
        Assert.Equal(exponent, slope, 3);
    }

    /// <remarks>Unsaturated Gaussian beam: effective width w sqrt(pi/2) = 1.2533 w (elementary integral).</remarks>
    [Fact]
    public void PhotonsAt_UnsaturatedGaussian_HasItsEffectiveWidth()
    {
        var yield = new DetectionYield(With(new Probe { Shape = ProbeShape.Gaussian, Width = new(1e-3), ScatteringRate = new(1e6) }));
        // the integral stops at 2.5 w, where 6e-7 of the light is left
        Assert.Equal(1e6 * 1e-3 * Math.Sqrt(Math.PI / 2) / 100, yield.PhotonsAt(100), 2e-5);
    }

    [Fact]
    public void PhotonsAt_SaturatedGaussian_IsWiderThanItsEffectiveWidth()
    {
        double Width(double s)
        {
            Probe probe = new() { Shape = ProbeShape.Gaussian, Width = new(1e-3), Saturation = new(s) };
            double peak = new DetectionYield(With(probe with { Shape = ProbeShape.TopHat })).PhotonsAt(100);
            return new DetectionYield(With(probe)).PhotonsAt(100) / peak;
        }
        Assert.Equal(1.2533, Width(1e-4), 3);
        Assert.InRange(Width(10), 1.6, 2.6);
    }

    /// <remarks>2 pi Gamma n_e/(n_g + n_e) s/(1 + s + 4 delta^2/Gamma^2) with the Doppler shift v cos(theta)/lambda; at 45 degrees and 606.3 nm
    /// 1.16627 MHz for 1 m/s (common practice, no source; recomputed by this team).</remarks>
    [Fact]
    public void PhotonsAt_ProbeAtAnAngle_FallsWithTheDopplerShift()
    {
        Setup setup = With(new Probe { Width = new(1e-3), Saturation = new(0.5), Angle = new(Math.PI / 4) });
        setup = setup with { Species = setup.Species with { Wavelength = new Measured(606.3e-9), NaturalLinewidth = new Measured(8.3e6) } };
        double delta = 1.16627e6 * 5, rate = 2 * Math.PI * 8.3e6 / 2 * 0.5 / (1.5 + 4 * delta * delta / (8.3e6 * 8.3e6));
        Assert.Equal(rate * 1e-3 / 5, new DetectionYield(setup).PhotonsAt(5), rate * 1e-3 / 5 * 1e-5);
    }
}
