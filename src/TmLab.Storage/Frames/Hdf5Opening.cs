using PureHDF;
using PureHDF.VOL.Native;
using TmLab.Failures;
using TmLab.Measurement;

namespace TmLab.Storage.Frames;

/// <summary>Opens HDF5 files of the bench; whatever the library throws at a damaged file becomes bad input that names file and dataset.</summary>
internal static class Hdf5Opening
{
    private const int MostListedDatasets = 1000;

    /// <summary>Opens a file.</summary>
    public static NativeFile Open(string path, string name)
    {
        Manifest.InputFile.OpenSequential(path, name).Dispose();
        return Guarded(name, null, () => H5File.OpenRead(path));
    }

    /// <summary>Finds a dataset; when it is absent, the nearest existing one is named.</summary>
    public static NativeDataset Dataset(NativeFile file, string name, string dataset)
    {
        bool exists = Guarded(name, dataset, () => Exists(file, dataset));
        if (exists && Guarded(name, dataset, () => file.Get(dataset)) is NativeDataset found)
        {
            return found;
        }

        string? nearest = Guarded(name, dataset, () => NearestName.Of(dataset, Paths(file, "").Take(MostListedDatasets)));
        throw new BadInputException(
            name, dataset, exists ? "it is a group, not a dataset" : "there is no such dataset",
            nearest is null ? "the file holds no dataset at all; check frames.path" : $"did you mean \"{nearest}\"?");
    }

    /// <summary>Runs an access to the file.</summary>
    public static T Guarded<T>(string name, string? dataset, Func<T> access)
    {
        try
        {
            return access();
        }
        catch (Exception failure) when (failure is not (TmLabException or OperationCanceledException or OutOfMemoryException))
        {
            // The library throws bare exceptions of many types when a file is damaged.
            throw new BadInputException(name, dataset, "the HDF5 file cannot be read there: it is damaged, cut short or uses an unknown filter", "copy it again, or save it without that filter", failure);
        }
    }

    private static bool Exists(NativeFile file, string dataset)
    {
        try
        {
            return file.LinkExists(dataset);
        }
        catch (Exception failure) when (failure is not OutOfMemoryException)
        {
            // A path through something that is no group.
            return false;
        }
    }

    private static IEnumerable<string> Paths(IH5Group group, string prefix, int depth = 0)
    {
        foreach (IH5Object child in group.Children())
        {
            string path = $"{prefix}/{child.Name}";
            if (child is IH5Dataset)
            {
                yield return path;
            }
            else if (child is IH5Group inner && depth < 16)
            {
                foreach (string deeper in Paths(inner, path, depth + 1))
                {
                    yield return deeper;
                }
            }
        }
    }
}
