using Pipeline.Apparatus;
using Pipeline.Quantities;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Apparatus;

public class EfficiencyTests
{
    /// <remarks>(1 - sqrt(1 - NA^2))/2, recomputed by this team, digits as printed.</remarks>
    [Theory]
    [InlineData(0.1, 0.00250628)]
    [InlineData(0.25, 0.01587708)]
    [InlineData(0.5, 0.06698730)]
    [InlineData(0.7, 0.14292858)]
    public void FromAperture_KnownApertures_Match(double aperture, double expected) =>
        Assert.Equal(expected, CollectedShare.FromAperture(new(aperture)).Value, 5e-9);

    /// <remarks>Lens of 25 mm at 50 mm: 0.01492875, recomputed by this team.</remarks>
    [Fact]
    public void FromLens_KnownLens_Matches() => Assert.Equal(0.01492875, CollectedShare.FromLens(new(0.025), new(0.05)).Value, 5e-9);

    /// <summary>Uncertainties against differences, in which the second order is 1e-6 of the first.</summary>
    [Fact]
    public void Collection_Uncertain_FollowsTheSlope()
    {
        double Lens(double d, double l) => CollectedShare.FromLens(new(d), new(l)).Value;
        double diameter = (Lens(0.0251, 0.05) - Lens(0.0249, 0.05)) / 2, distance = (Lens(0.025, 0.0502) - Lens(0.025, 0.0498)) / 2;
        Assert.Equal(double.Hypot(diameter, distance), CollectedShare.FromLens(new(0.025, 1e-4), new(0.05, 2e-4)).Sigma, 1e-8);
        Assert.Equal((CollectedShare.FromAperture(new(0.71)).Value - CollectedShare.FromAperture(new(0.69)).Value) / 2, CollectedShare.FromAperture(new(0.7, 0.01)).Sigma, 1e-6);
    }

    [Theory]
    [InlineData(0)]
    [InlineData(1)]
    [InlineData(-0.5)]
    public void FromAperture_OutOfRange_Refuses(double aperture) => Assert.Throws<ArgumentOutOfRangeException>(() => CollectedShare.FromAperture(new(aperture)));

    /// <remarks>1000 counts, 0.014929 x 0.6 x 0.2 and 20 photons a molecule: 27 910.35 molecules; relative uncertainties of 2, 8, 3, 10, 5
    /// and 15 % make 20.7 %. Recomputed by this team.</remarks>
    [Fact]
    public void Product_WorkedExample_GivesNumberAndUncertainty()
    {
        EfficiencyFactor[] three = [new("collection", CollectedShare.FromLens(new(0.025), new(0.05))), new("transmission", new(0.6)), new("quantum efficiency", new(0.2))];
        Setup setup = TestSetups.OneMetre(new InstantEmission(), 1e9, 20);
        setup = setup with { Detector = setup.Detector with { EfficiencyFactors = three } };
        // probed so long that all 20 photons are scattered
        Assert.Equal(27_910.35, 1000 / new DetectionYield(setup).CountsAt(100), 0.01);
        double[] percent = [2, 8, 3, 10, 5, 15];
        EfficiencyFactor[] six = [.. EfficiencyFactor.Names.Select((n, i) => new EfficiencyFactor(n, new Measured(0.5, 0.5 * percent[i] / 100)))];
        Measured product = EfficiencyFactor.Product(six);
        Assert.Equal(Math.Pow(0.5, 6), product.Value, 1e-15);
        Assert.Equal(0.207, product.Sigma / product.Value, 5e-4);
    }

    /// <summary>Each factor is a nuisance of its own, and none counts twice.</summary>
    [Fact]
    public void Nuisances_Itemised_AreTheFactors()
    {
        Setup setup = TestSetups.OneMetre(new InstantEmission(), 1e9, 20);
        setup = setup with
        {
            LevelShare = new Measured(0.28, 0.03),
            Detector = setup.Detector with { VoltSecondPerElectron = new Measured(1e-7, 2e-9), EfficiencyFactors = [new("collection", new(0.01, 0.0005)), new("anisotropy", new(1.1, 0.1)), new("quantum efficiency", new(0.2))] },
        };
        Dictionary<string, double> moved = Nuisances.Of(setup).ToDictionary(n => n.Name, n => n.Shift(setup, 1).CountsPerPhoton / setup.CountsPerPhoton, StringComparer.Ordinal);
        Assert.Equal(["anisotropy", "collection", "gain", "level share"], moved.Keys.Order(StringComparer.Ordinal));
        Assert.Equal(0.28 * 0.01 * 1.1 * 0.2, setup.CountsPerPhoton, 1e-15);
        Assert.Equal((1.05, 1 + 0.1 / 1.1, 1.02, 1 + 0.03 / 0.28), (moved["collection"], moved["anisotropy"], moved["gain"], moved["level share"]), Close);
        Assert.All(Nuisances.Of(setup), n => Assert.True(n.ScalesOnly));
    }

    [Theory]
    [InlineData("transmission", 1.01)]
    [InlineData("collection", 0)]
    [InlineData("anisotropy", -1)]
    public void Factor_OutOfRange_Refuses(string name, double value) => Assert.Throws<ArgumentOutOfRangeException>(() => new EfficiencyFactor(name, new(value)));

    static bool Close((double A, double B, double C, double D) x, (double A, double B, double C, double D) y) =>
        Math.Abs(x.A - y.A) + Math.Abs(x.B - y.B) + Math.Abs(x.C - y.C) + Math.Abs(x.D - y.D) < 1e-12;
}
