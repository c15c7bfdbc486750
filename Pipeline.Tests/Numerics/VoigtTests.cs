using Pipeline.Numerics;

namespace Pipeline.Tests.Numerics;

public class VoigtTests
{
    /// <remarks>Recomputed by this team; (0; 1, 0) is 1/sqrt(2 pi), (0; 0, 1) is 1/pi.</remarks>
    [Theory]
    [InlineData(0, 1, 0, 0.398942280401433)]
    [InlineData(0, 0, 1, 0.318309886183791)]
    [InlineData(0, 1, 1, 0.208709280520368)]
    [InlineData(1, 1, 1, 0.165795662689167)]
    [InlineData(2, 1, 0.5, 0.0824240827885869)]
    [InlineData(5, 1, 0.1, 0.00147191634998453)]
    [InlineData(10, 1, 1, 0.00324873485976909)]
    public void Density_PublishedArguments_Matches(double x, double sigma, double gamma, double expected) =>
        Assert.Equal(expected, Voigt.Density(x, sigma, gamma), expected * 1e-11);

    /// <remarks>Full widths at half maximum: recomputed by this team, ten digits; half a unit of the last moves the density by 3e-10.</remarks>
    [Theory]
    [InlineData(1, 1, 3.601135677)]
    [InlineData(1, 0.1, 2.463246367)]
    [InlineData(0.1, 1, 2.029496387)]
    public void Density_AtHalfWidth_IsHalf(double sigma, double gamma, double width) =>
        Assert.Equal(0.5, Voigt.Density(0.5 * width, sigma, gamma) / Voigt.Density(0, sigma, gamma), 5e-10);

    /// <remarks>Corrections to the limits are (sigma/gamma)^2 and gamma/sigma of the density.</remarks>
    [Theory]
    [InlineData(0)]
    [InlineData(0.7)]
    [InlineData(3)]
    public void Density_NearEitherLimit_ApproachesIt(double x)
    {
        Assert.Equal(1, Voigt.Density(x, 1e-6, 1) / Voigt.Density(x, 0, 1), 1e-11);
        Assert.Equal(Voigt.Density(x, 1, 0), Voigt.Density(x, 1, 1e-12), 1e-12);
    }

    [Fact]
    public void Density_WingsOfAnAlmostPureGaussian_AreNotNegative()
    {
        foreach (double gamma in (double[])[1e-19, 3.351725325350077e-16, 1e-12])
            for (double x = 4; x < 14; x += 0.01) Assert.True(Voigt.Density(x, 1, gamma) >= 0, $"{x} {gamma}");
        // rounding made this one negative
        Assert.Equal(0, Voigt.Density(10.35089539587332, 1, 3.351725325350077e-16), 1e-17);
    }

    [Theory]
    [InlineData(0, 0, 0)]
    [InlineData(0, -1, 1)]
    [InlineData(0, 1, -1)]
    [InlineData(0, double.NaN, 1)]
    [InlineData(0, 1, double.NaN)]
    [InlineData(double.NaN, 1, 1)]
    public void Density_BadInput_IsRefused(double x, double sigma, double gamma) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => Voigt.Density(x, sigma, gamma));
}
