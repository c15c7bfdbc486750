using Pipeline.Quantities;

namespace Pipeline.Apparatus;

/// <summary>Share of light that goes evenly in all directions and is collected by a cone.</summary>
/// <remarks>(1 - cos a)/2 for the half angle a: the cone's solid angle over 4 pi. Exact for a point on the axis; off it, apertures cut more.</remarks>
public static class CollectedShare
{
    /// <summary>A numerical aperture in vacuum, sin a.</summary>
    /// <param name="aperture">In (0, 1).</param>
    public static Measured FromAperture(Measured aperture)
    {
        double na = aperture.Value is > 0 and < 1 ? aperture.Value : throw new ArgumentOutOfRangeException(nameof(aperture), aperture.Value, "must lie in (0, 1)");
        double cosine = Math.Sqrt((1 - na) * (1 + na));
        // 1 - cos a = sin^2 a/(1 + cos a), which does not cancel for small cones
        return new Measured(0.5 * na * na / (1 + cosine), 0.5 * na / cosine * aperture.Sigma);
    }

    /// <summary>A lens.</summary>
    /// <param name="diameter">Free diameter, m.</param>
    /// <param name="distance">From the molecules to the lens, m.</param>
    public static Measured FromLens(Measured diameter, Measured distance)
    {
        double radius = 0.5 * Guard.Positive(diameter.Value), along = Guard.Positive(distance.Value), square = radius * radius + along * along;
        double sine = radius / Math.Sqrt(square), angle = double.Hypot(along * 0.5 * diameter.Sigma, radius * distance.Sigma) / square;
        return FromAperture(new Measured(sine, angle * along / Math.Sqrt(square)));
    }
}
