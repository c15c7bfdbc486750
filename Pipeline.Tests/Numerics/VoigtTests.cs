using System.Numerics;
using Pipeline.Apparatus;
using Pipeline.Numerics;

namespace Pipeline.Tests.Numerics;

public class VoigtTests
{
    /// <remarks>Values of w(z): recomputed by this team with 30 digits of an arbitrary-precision library. Tolerance: 1e-13 of |w|, the
    /// accuracy that is stated.</remarks>
    [Theory]
    [InlineData(0, 0.1, 0.896456979969127, 0)]
    [InlineData(0, 1, 0.427583576155807, 0)]
    [InlineData(1, 1, 0.304744205256913, 0.208218938202832)]
    [InlineData(2, 0.5, 0.103358823741367, 0.284785884750094)]
    [InlineData(0.5, 0.1, 0.717587742157594, 0.408474401603016)]
    [InlineData(5, 0.001, 2.40804639671034e-5, 0.115245956674504)]
    [InlineData(0, 10, 0.0561409927438226, 0)]
    [InlineData(6.3, 1e-8, 1.47893455037235e-10, 0.0907276596841274)]
    public void W_PublishedArguments_MatchesToThirteenDigits(double x, double y, double real, double imaginary)
    {
        Complex w = Faddeeva.W(new Complex(x, y)), expected = new(real, imaginary);
        Assert.InRange((w - expected).Magnitude, 0, 1e-13 * expected.Magnitude + 1e-15);
    }

    /// <remarks>Source as above; (0; 1, 0) is 1/sqrt(2 pi), (0; 0, 1) is 1/pi.</remarks>
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

    /// <remarks>Exponential-Gaussian with mu 0, s 1, tau 2; values recomputed by this team.</remarks>
    [Theory]
    [InlineData(0, 0.17480941736)]
    [InlineData(1, 0.23761736816)]
    [InlineData(2, 0.194506317414)]
    [InlineData(5, 0.0465070865889)]
    public void ExponentialGaussian_PublishedTimes_Matches(double t, double expected) =>
        Assert.Equal(expected, new ExponentialGaussianEmission { Width = new(1), Tail = new(2) }.DensityAt(t), 11);

    [Theory]
    [InlineData(1, 2)]
    [InlineData(1, 0.01)]
    [InlineData(0.01, 1)]
    public void ExponentialGaussian_Integrals_FollowTheDensity(double width, double tail)
    {
        var pulse = new ExponentialGaussianEmission { Width = new(width), Tail = new(tail) };
        (double low, double high) = pulse.Support;
        double at = low, step = (high - low) / 40_000, sum = 0, twice = 0, before = 0;
        for (int k = 0; k < 40_000; k++, at += step)
        {
            double middle = pulse.DensityAt(at + 0.5 * step);
            Assert.True(middle >= 0);
            sum += step * middle;
            double cumulative = pulse.CumulativeAt(at + step);
            Assert.True(cumulative >= before - 1e-12);
            before = cumulative;
            twice += step * pulse.CumulativeAt(at + 0.5 * step);
            // midpoint rule on a step of 1/40,000 of the support
            if (k % 1000 == 0) Assert.Equal(sum, cumulative, 4);
        }
        Assert.Equal(1, before, 12);
        Assert.Equal(twice, pulse.IntegratedCumulativeAt(high), 1e-6 * high);
        // mean of the pulse: the area above the cumulative
        Assert.Equal(pulse.MeanTime, high - pulse.IntegratedCumulativeAt(high), 9);
    }
}
