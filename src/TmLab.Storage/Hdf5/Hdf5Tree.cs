using PureHDF;

namespace TmLab.Storage.Hdf5;

/// <summary>Groups, datasets and attributes by absolute name, in the order in which they were added, for the HDF5 library to write.</summary>
internal sealed class Hdf5Tree
{
    private readonly H5File _root = [];

    /// <summary>Adds a dataset; groups on the way to it are made.</summary>
    public H5Dataset Add(string path, H5Dataset dataset, string units)
    {
        int slash = path.LastIndexOf('/');
        dataset.Attributes["units"] = units;
        Group(path[..slash]).Add(path[(slash + 1)..], dataset);
        return dataset;
    }

    /// <summary>Adds an attribute to a dataset that has been added, or to a group, which is made where it is missing.</summary>
    public void AddAttribute(string path, string name, object value)
    {
        int slash = path.LastIndexOf('/');
        H5Group parent = Group(path[..slash]);
        H5Object target = parent.TryGetValue(path[(slash + 1)..], out object? found) && found is H5Dataset dataset ? dataset : Group(path);
        target.Attributes[name] = value;
    }

    /// <summary>The tree as the HDF5 library takes it.</summary>
    public H5File Build() => _root;

    private H5Group Group(string path)
    {
        H5Group group = _root;
        foreach (string name in path.Split('/', StringSplitOptions.RemoveEmptyEntries))
        {
            if (!group.TryGetValue(name, out object? child))
            {
                child = new H5Group();
                group.Add(name, child);
            }

            group = (H5Group)child;
        }

        return group;
    }
}
